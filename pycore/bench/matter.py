"""The matter before the judge: one job beside one edition, with everything the checks share."""

from collections.abc import Mapping
from dataclasses import dataclass
from decimal import Decimal

from pycore.bench.expected import Due, due, has_marked_height, read_prism, sightings_of
from pycore.bench.repeats import Repeated, repeated
from pycore.editions.edition import Edition, Row
from pycore.job.bench import Uncertainty
from pycore.job.body import SEGMENTED
from pycore.job.document import Job
from pycore.optics.prism import EYES, Eye, Prism

PAIR = "pair"
MERIDIAN = {"vertical": Decimal(90), "horizontal": Decimal(180)}


def component_of(prism: Prism, component: str) -> Decimal:
    """The vertical (up positive) or horizontal (to the observer's right) part of a prism."""
    return prism.y if component == "vertical" else prism.x


@dataclass(frozen=True, slots=True, kw_only=True)
class Check:
    """One limit held against one deviation; all in `unit`.

    `chance` is the probability that the truth lies within; `counts` is false for what is
    shown as information only, `measured` false for a computed figure, which never counts.
    """

    id: str
    group: str
    eye: str
    ordered: Decimal
    read: Decimal
    deviation: Decimal
    uncertainty: float
    chance: float
    unit: str
    row: Row
    limit: Decimal
    component: str | None = None
    measured: bool = True
    counts: bool = True

    @property
    def margin(self) -> Decimal:
        """What is left up to the limit; negative beyond it."""
        return self.limit - abs(self.deviation)

    @property
    def within(self) -> bool:
        """Compared in decimals: on the limit is within."""
        return abs(self.deviation) <= self.limit

    @property
    def doubt(self) -> float:
        """The probability that this check's outcome is wrong."""
        return 1.0 - self.chance if self.within else self.chance


@dataclass(frozen=True, slots=True, kw_only=True)
class Matter:
    """One job beside one edition with its options chosen."""

    job: Job
    edition: Edition
    chosen: Mapping[str, str]
    designs: Mapping[Eye, str]
    dues: Mapping[Eye, Due]
    reads: Mapping[Eye, Prism]
    repeats: Mapping[Eye, Repeated]

    @property
    def uncertainty(self) -> Uncertainty:
        """The bench's standard uncertainties."""
        return self.job.instrument.uncertainty

    @property
    def pair_is_ordered(self) -> bool:
        """Tell whether both lenses are ordered."""
        return len(self.dues) == 2

    def error(self, eye: Eye) -> Prism | None:
        """Read minus expected, in prism dioptres, or None where not read."""
        read, due_ = self.reads.get(eye), self.dues.get(eye)
        return read - due_.expected if read is not None and due_ else None

    @property
    def own_eyes(self) -> tuple[Eye, ...]:
        """The eyes whose lens is judged: those ordered, without an existing partner lens."""
        return tuple(eye for eye, due_ in self.dues.items() if not due_.partner)

    def row(
        self,
        check: str,
        sizes: Mapping[str, Decimal],
        state: str | None = None,
        component: str | None = None,
        eye: Eye | None = None,
    ) -> Row | None:
        """The edition's row for one lens's design, or for the pair's.

        Arguments as `Edition.row`; `state` if not the job's; `eye` for one lens. Where the
        pair's designs differ the smaller limit holds, and an alternative must be open to both
        (common practice).
        """
        designs = {self.designs[eye]} if eye else set(self.designs.values())
        rows = [
            self.edition.row(
                check,
                design=design,
                state=state or self.job.state,
                chosen=self.chosen,
                sizes=sizes,
                component=component,
            )
            for design in sorted(designs)
        ]
        found = [row for row in rows if row]
        if len(found) < len(rows) and check.startswith("prp."):
            return None
        return min(found, key=lambda row: row.limit(sizes), default=None)

    def option(self, name: str) -> str:
        """The value chosen for an option, or "" where the edition does not offer it."""
        return self.chosen.get(name, "")

    def vertical_is_marked(self, eye: Eye) -> bool:
        """Tell whether a lens's own vertical reading means something: point and place known."""
        order = self.job.order(eye)
        return (
            order is not None
            and has_marked_height(order, self.job.state)
            and self.place == "marked-point"
        )

    @property
    def place(self) -> str:
        """Where the readings were taken; where not said, at the marks if the lenses have any."""
        if self.job.readings.at:
            return self.job.readings.at
        marked = all(has_marked_height(order, self.job.state) for order in self.job.orders)
        return "marked-point" if marked else "first-lens-set"

    @property
    def vertical_pair_is_readable(self) -> bool:
        """Tell whether the pair's vertical can be judged from these readings at all."""
        marked = all(has_marked_height(order, self.job.state) for order in self.job.orders)
        known = {due_.vertical_known for due_ in self.dues.values()}
        return (marked or self.place == "first-lens-set") and len(known) == 1


def repeated_of(job: Job, eye: Eye) -> Repeated:
    """What the readings of one lens say of their mean. Arguments: `job`; `eye`."""
    instrument = job.instrument
    return repeated(sightings_of(job, eye), instrument.uncertainty.prism, instrument.prism_step)


def design_group(design: str | None) -> str:
    """The edition's group of a design; single vision where nothing is said.

    >>> design_group("near"), design_group("trifocal")
    ('single-vision', 'multifocal')
    """
    if design in SEGMENTED:
        return "multifocal"
    return "progressive" if design == "progressive" else "single-vision"


def matter_of(job: Job, edition: Edition) -> Matter:
    """Lay one job beside one edition. Arguments: `job`; `edition`. Returns the Matter."""
    dues = {eye: found for eye in EYES if (found := due(job, eye))}
    designs = {order.eye: design_group(order.lens.design) for order in job.orders}
    own = {eye: design for eye, design in designs.items() if not dues[eye].partner}
    return Matter(
        job=job,
        edition=edition,
        chosen={**edition.options, **job.edition_options},
        designs={
            eye: own.get(eye) or next(iter(own.values()), design) for eye, design in designs.items()
        },
        dues=dues,
        reads={eye: read for eye in dues if (read := read_prism(job, eye)) is not None},
        repeats={eye: repeated_of(job, eye) for eye in dues},
    )
