"""What the evidence states besides its numbers: domain of use, what both sides share, how to redo it."""

from __future__ import annotations

from crosscheck.verification import common_causes

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

COMMON_CAUSES = tuple(
    f"{cause.name.capitalize()}. {cause.text} What shows it: {cause.shows}"
    for cause in common_causes.COMMON_CAUSES
)

HOW_TO_REDO = (
    "crosscheck verify --out evidence runs everything and writes this page, verification.json and "
    "verification.xml (JUnit).",
    "crosscheck verify --name NAME, --source SOURCE or --feature FEATURE runs a part; a file or folder of "
    "rows runs rows of your own.",
    "Every row names its section file and the parameters set in it: crosscheck compare SECTION "
    '--set "t = 2" shows the section itself.',
)
