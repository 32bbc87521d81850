"""What the evidence states besides its numbers: domain of use, what both sides share, how to redo it."""

from __future__ import annotations

DOMAIN_OF_USE = (
    "Prismatic, straight beams of linear-elastic, isotropic materials; small displacements.",
    "Saint-Venant torsion and flexure; the cross-section keeps its shape; restrained warping enters only as "
    "the warping constant and Vlasov's bimoment stress.",
    "Walls from hair-thin to about as thick as a third of the section's depth; where theory leaves the "
    "solid, the known differences of this suite say by how much.",
    "Both sides are compared at nu = 0; flexure with Poisson's ratio stands beside it, for one material.",
    "Outside it: buckling and effective widths, shear lag, plasticity, orthotropic skins, curved or tapered "
    "beams, local stress at sharp re-entrant corners (infinite in the model, and none is reported).",
    "Verification and model comparison: not test evidence, not approval. The applicable code and a licensed "
    "engineer decide.",
)

COMMON_CAUSES = (
    "Both sides take the same mechanics: Saint-Venant's and Vlasov's hypotheses. Agreement says nothing "
    "about what these leave out.",
    "Both are built from one section file by one reader: a wrong dimension in the file, or a fault of the "
    "reader, is wrong on both. Rows entered as an outline as well as by walls look for that.",
    "Both use double precision and the same numerical libraries (numpy, scipy); FE also gmsh and shapely.",
    "Signs, axes and the definition of every quantity are agreed between the sides and written by the same "
    "people.",
    "The unit of a value is that of its section file; nothing checks that a file's numbers are in its units.",
)

HOW_TO_REDO = (
    "crosscheck verify --out evidence runs everything and writes this page, verification.json and "
    "verification.xml (JUnit).",
    "crosscheck verify --name NAME, --source SOURCE or --feature FEATURE runs a part; a file or folder of "
    "rows runs rows of your own.",
    "Every row names its section file and the parameters set in it: crosscheck compare SECTION "
    '--set "t = 2" shows the section itself.',
)
