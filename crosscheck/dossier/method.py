"""The chapter on method: both sides with their equations and sources, signs, definitions, idealisation."""

from __future__ import annotations

from crosscheck.dossier.content import Block, Chapter, Equation, Figure, Heading, Listing, Paragraph
from crosscheck.pictures.canvas import picture_bytes
from crosscheck.pictures.signs import signs_picture

THEORY_SOURCES = (
    "Shear flow by basic and closing flows, direct stress with a product moment: T. H. G. Megson, Aircraft "
    "Structures for Engineering Students (common practice).",
    "Torsion of cells: R. Bredt, Zeitschrift des VDI 40, 1896 (from memory); of several cells, Bredt-Batho "
    "(common practice).",
    "Warping, bimoment, shear centre from sectorial moments: V. Z. Vlasov, Thin-Walled Elastic Beams, "
    "2nd ed., 1961 (from memory).",
    "End and joint terms of the level corrected: G. W. Trayer and H. W. March, NACA report 334, 1930 "
    "(as handbooks quote it), and the sources named in the level's notes.",
)
FE_SOURCES = (
    "Saint-Venant torsion and flexure of the solid section: S. P. Timoshenko and J. N. Goodier, Theory of "
    "Elasticity (common practice).",
    "Two-sided bounds from a kinematic and a static field: W. Prager and J. L. Synge, Quarterly of Applied "
    "Mathematics 5, 1947 (from memory).",
    "Shear centre as the point about which flexure does no work on twist: E. Trefftz, Zeitschrift für "
    "angewandte Mathematik und Mechanik 15, 1935 (from memory).",
)


def method_chapter() -> Chapter:
    """Method of both sides; the same for every section."""
    return Chapter("method", "Method", (*_shared(), *_theory(), *_fe(), *_definitions()))


def _shared() -> tuple[Block, ...]:
    return (
        Paragraph(
            "One section file is solved twice. Classical thin-walled theory works on the midlines; the "
            "finite-element side meshes the solid that the walls make and solves warping in its plane. "
            "The two share the section file and no code. Every difference is theory minus FE over a "
            "normaliser, and is judged against a criterion with the FE error taken into account:"
        ),
        Equation("verdict"),
        Paragraph(
            "d is the magnitude of the difference, u half the FE interval over the same normaliser, c the "
            "criterion. Normalisers: the FE value; the larger overall dimension D for positions; √(Ixx Iyy) "
            "for Ixy; the larger of FE's value and J D² for the warping constant; FE's peak of the load for "
            "flows and stresses."
        ),
        Heading("Axes and signs"),
        Listing(
            (
                "x to the right, y up, z towards the viewer; the face seen is the one whose outward "
                "normal is z.",
                "V, T, N, M, B are resultants of the stress on that face. T is positive anticlockwise.",
                "Mx > 0 puts +y in tension, My > 0 puts +x in tension: My is not the right-hand vector.",
                "q > 0 along a wall's own direction, which the figures show by an arrowhead.",
                "e = E/E_base and g = G/G_base; without materials results are per unit modulus.",
            )
        ),
        Figure(
            "signs",
            picture_bytes(signs_picture(), "svg"),
            "Axes and signs of every figure and number in this dossier.",
            "Axes x right, y up, z at the viewer; shear along the axes; torque anticlockwise; Mx puts "
            "the upper side in tension, My the right one; a flow is positive along its wall's direction.",
        ),
    )


def _theory() -> tuple[Block, ...]:
    return (
        Heading("Hand method: classical theory on the midline"),
        Paragraph("Direct stress and the slope of direct stress along the beam, axes through the centroid:"),
        Equation("bending"),
        Equation("flow"),
        Paragraph(
            "A boom of area A_b makes q jump by -e A_b (a x + b y). Each independent cell is cut once; "
            "the basic flow starts at free ends and cuts, and a closing flow per cell makes the rate "
            "of twist zero:"
        ),
        Equation("closing"),
        Paragraph(
            "Torsion of cells and open walls together, F the flexibilities of the cells (integral of "
            "ds/(g t), shared walls off the diagonal) and A_m their enclosed areas:"
        ),
        Equation("torsion"),
        Equation("surface"),
        Paragraph(
            "Warping function per unit rate of twist, with p the arm about the shear centre, and its "
            "constant:"
        ),
        Equation("warping"),
        Equation("shear_area"),
        Paragraph(
            "Levels: midline is the above with sharp corners and without own-thickness terms; corrected adds "
            "bends as arcs, own-thickness second moments and torsion, and published end and joint "
            "terms; lumped gathers the direct-stress area in booms. The level named as judged carries "
            "the verdicts."
        ),
        Listing(THEORY_SOURCES),
    )


def _fe() -> tuple[Block, ...]:
    return (
        Heading("Finite elements: the real outline"),
        Paragraph(
            "Torsion from above by the warping function, from below by the stress function (G_base = 1):"
        ),
        Equation("kinematic"),
        Equation("static"),
        Equation("gap"),
        Paragraph(
            "The exact J of the model lies between the two whatever the mesh; the shares of the gap "
            "say where to refine. Flexure by unit shears, solved by a kinematic and an equilibrated "
            "field alike:"
        ),
        Equation("flexure"),
        Paragraph(
            "Shear centre from the torque of the flexure stress, with γ the gaps of torsion and flexure:"
        ),
        Equation("centre_fe"),
        Paragraph(
            "Basis of an interval: exact of the outline; bound; bound on the interpolated outline, "
            "where curved sides are met by interpolated ones; estimate for warping constant, flows at "
            "probes and stresses. An estimate is never called a bound."
        ),
        Listing(FE_SOURCES),
    )


def _definitions() -> tuple[Block, ...]:
    return (
        Heading("Shear centre and torque"),
        Paragraph(
            "Theory's shear centre makes the moment of the shear flow without twist vanish; FE's is "
            "the energy (Trefftz) one. A load acts on one physical line through (x_p, y_p); each side takes "
            "its torque about its own centre, p now the arm about the centroid:"
        ),
        Equation("centre"),
        Equation("torque"),
        Heading("Idealisation"),
        Listing(
            (
                "The solid is the union of all walls, each swept half its thickness to both sides.",
                "Outer sides of a bend are extended to a mitre; beyond four times the larger thickness "
                "a bevel, where an obtuse bend of unequal walls leaves no mitre a step; both are reported.",
                "Free ends are square. Named corners are rounded on both sides of the wall.",
                "Flows are compared at probes in the strips of the walls, clear of the joints; a sharp "
                "re-entrant corner has no peak stress and none is reported.",
                "A boom is a point to theory; FE spreads it over its joint or a patch of its wall.",
                "Poisson's ratio is zero in the comparison, since theory has none; its effect stands beside.",
            )
        ),
    )
