"""An invented report with every field in use. The figures are made up and only look like figures."""

from __future__ import annotations

from checker.record import (
    Accepted,
    Bias,
    Bound,
    CardUsed,
    Certificate,
    Change,
    Checked,
    Complex,
    Conditions,
    Connection,
    Effect,
    FetBias,
    Finding,
    Gain,
    Group,
    Island,
    Location,
    Measured,
    NetFigures,
    Port,
    Rail,
    Remedy,
    Report,
    SmallSignal,
    SourceFile,
    Span,
    Specs,
    Stage,
    StageLink,
    TerminalFigures,
    Thumb,
    Tool,
    Unchecked,
    Window,
    WorkingLine,
    at,
)

FILE = "boards/receiver.net"


def report() -> Report:
    """A receiver input: common base Q1, follower Q2, a JFET buffer J1, a driver Q10 without a solution."""
    return Report(
        tool=Tool(version="0.1.0"),
        netlist=SourceFile(path=FILE, format="spice", sha256="0123456789abcdef" * 4),
        conditions=Conditions(
            temperature_c=25.0,
            band_hz=(3e6, 20e6),
            f0_hz=7.74596669241e6,
            limits={"input-mismatch": {"return_loss_db": 14.0}, "stiff-divider": {"shift_percent": 10.0}},
            intent="boards/receiver.intent.toml",
        ),
        checked=Checked(stages=3, of=4),
        assumptions=("port IF: taken from connector J2, the only plug without a signal behind it",),
        cautions=("Q10: its island has no operating point; figures of stages fed by it are missing",),
        rails=(
            Rail(net="+12V", volts=12.0, source="intent"),
            Rail(net="+5V", volts=5.0, source="net name"),
        ),
        nets={"/rx/ANT": NetFigures(dc_v=0.0), "N1": NetFigures(dc_v=1.234), "N9": NetFigures(dc_v=None)},
        islands=_islands(),
        stages=(_common_base(), _follower(), _jfet(), _unsolved()),
        groups=(_group(),),
        ports=_ports(),
        gains=_gains(),
        findings=(_mismatch(), _may_violate(), _structural()),
        accepted=(
            Accepted(
                finding=_finding(
                    rule="swing-small", subject=("Q2",), message="Q2 clips at 1.9 Vpp.", fingerprint="acc0"
                ),
                reason="the level never passes 1 Vpp here",
                by="RF lead",
                until="2027-06-30",
            ),
        ),
        unchecked=(
            Unchecked(
                subject="Q10",
                rule="",
                datum="a model for U3, which feeds its base",
                supply="a [[part]] entry for U3, or the voltage of net DRV in [rails]",
            ),
            Unchecked(
                subject="Q1",
                rule="noise-figure",
                datum="the source impedance",
                supply="impedance of port ANT",
            ),
        ),
        unavailable=_unavailable(),
    )


def _unavailable() -> dict[str, str]:
    stage, lack = ("stages", "Q1", "specs"), "not computed by this version"
    return {
        at("nets", "N9"): "lies between capacitors only",
        at("islands", "DRV"): "U3 has no model",
        at(*stage, "noise_figure_db"): lack,
        at("stages", "Q2", "specs", "power_gain_db"): lack,
        at("stages", "Q2", "specs", "high_corner_hz"): "no corner below 100 GHz",
        at("stages", "Q2", "specs", "noise_figure_db"): lack,
        at("stages", "Q2", "rule_of_thumb", "output_impedance_ohm"): "no exact figure at the terminal",
        at("stages", "Q2", "terminal"): lack,
        at("stages", "J1", "specs"): "no signal path reaches it",
        at("stages", "J1", "terminal"): "no signal path reaches it",
        at("stages", "J1", "small_signal"): "has no bipolar parameters",
        at("stages", "Q10"): "its island has no operating point: U3 has no model",
        at("groups", "Q1+Q2"): lack,
        at("ports", "IF"): "nothing drives it in the band",
        at("gains", "ANT", "IF", "transducer_gain_db"): "port IF has no reference",
        at("gains", "ANT", "IF", "high_corner_hz"): "no corner below 100 GHz",
    }


def _islands() -> tuple[Island, ...]:
    proof = Certificate(
        kcl=3.1e-14, step_v=2.2e-13, condition=4.5e4, sign=1, stable=True, states=1, search="exhaustive"
    )
    return (Island(nets=("N2", "N1"), certificate=proof), Island(nets=("DRV",), certificate=None))


def _common_base() -> Stage:
    return Stage(
        id="Q1",
        device="Q1",
        configuration="common-base",
        role="signal",
        confidence=0.97,
        groups=("Q1+Q2",),
        entry=Connection(terminal="emitter", net="N1"),
        exit=Connection(terminal="collector", net="N2"),
        input_ref="N1",
        output_ref="N2",
        links=(
            StageLink(side="input", kind="capacitor", part="C1", net="N1", far_net="/rx/ANT", other="ANT"),
            StageLink(side="output", kind="direct", net="N2", far_net="N2", other="Q2"),
        ),
        location=Location(file=FILE, line=12, sheet="/rx/"),
        card=CardUsed(name="2N3904", source="from memory, check the data sheet", assumed=False),
        bias=Bias(
            region="active",
            ic_a=4.9e-3,
            ib_a=31e-6,
            vce_v=6.02,
            vbe_v=0.702,
            headroom_v=5.4,
            power_w=29.5e-3,
            tj_c=30.9,
        ),
        small_signal=SmallSignal(gm_s=0.186, re_ohm=5.21, rpi_ohm=850.0, ro_ohm=21.3e3, ft_hz=287e6),
        specs=Specs(
            voltage_gain=Complex(re=24.1, im=-6.2),
            voltage_gain_db=27.92,
            current_gain=Complex(re=0.91, im=-0.05),
            power_gain_db=15.3,
            input_impedance_ohm=Complex(re=33.4, im=1.9),
            output_impedance_ohm=Complex(re=812.0, im=-143.0),
            low_corner_hz=412e3,
            high_corner_hz=48.2e6,
            droop_low_db=0.08,
            droop_high_db=0.71,
            clip_up_v=3.1,
            clip_down_v=2.6,
            swing_vpp=5.2,
        ),
        terminal=TerminalFigures(
            voltage_gain=Complex(re=151.0, im=-38.0),
            input_impedance_ohm=Complex(re=5.38, im=0.31),
            output_impedance_ohm=Complex(re=812.0, im=-143.0),
        ),
        rule_of_thumb={
            "input_impedance_ohm": Thumb(
                value=5.21, exact=5.39, deviation=-0.0334, agrees=True, formula="re' = VT / IE"
            ),
            "voltage_gain": Thumb(
                value=192.0,
                exact=155.7,
                deviation=0.233,
                agrees=False,
                formula="rc / re'",
                note="ro and the collector capacitance load rc",
            ),
        },
        spread={"voltage_gain_db": Span(min=26.9, max=28.7, dominant="R4")},
        evidence=("base at signal ground through C2, 0.16 Ω at 7.75 MHz", "drive arrives at the emitter"),
    )


def _follower() -> Stage:
    return Stage(
        id="Q2",
        device="Q2",
        configuration="common-collector",
        role="signal",
        confidence=0.9,
        groups=("Q1+Q2",),
        entry=Connection(terminal="base", net="N2"),
        exit=Connection(terminal="emitter", net="N3"),
        input_ref="N2",
        output_ref="N3",
        location=Location(file=FILE, line=19),
        card=CardUsed(name="generic-npn", source="stands in for an unknown part", assumed=True),
        bias=Bias(
            region="active",
            ic_a=9.1e-3,
            ib_a=52e-6,
            vce_v=5.1,
            vbe_v=0.72,
            headroom_v=4.5,
            power_w=46.4e-3,
            tj_c=34.3,
        ),
        small_signal=SmallSignal(gm_s=0.34, re_ohm=2.82, rpi_ohm=520.0, ro_ohm=11e3, ft_hz=301e6),
        specs=Specs(
            voltage_gain=Complex(re=0.968, im=-0.01),
            voltage_gain_db=-0.28,
            current_gain=Complex(re=11.2, im=-3.0),
            input_impedance_ohm=Complex(re=6810.0, im=-2950.0),
            output_impedance_ohm=Complex(re=8.1, im=0.9),
            low_corner_hz=2.4e3,
            droop_low_db=0.0,
            droop_high_db=0.01,
            clip_up_v=4.1,
            clip_down_v=0.95,
            swing_vpp=1.9,
        ),
        rule_of_thumb={
            "output_impedance_ohm": Thumb(value=7.6, exact=None, deviation=None, agrees=None, formula="re'")
        },
    )


def _jfet() -> Stage:
    return Stage(
        id="J1",
        device="J1",
        configuration="common-drain",
        role="bias",
        confidence=0.55,
        reason="no signal path reaches it",
        location=Location(file=FILE, line=30),
        bias=FetBias(
            region="active",
            id_a=2.2e-3,
            ig_a=-3e-12,
            vds_v=7.0,
            vgs_v=-1.1,
            headroom_v=5.2,
            power_w=15.4e-3,
            tj_c=27.2,
            reversed=True,
        ),
        small_signal=SmallSignal(gm_s=4.1e-3, re_ohm=None, rpi_ohm=None, ro_ohm=None, ft_hz=None),
    )


def _unsolved() -> Stage:
    return Stage(
        id="Q10",
        device="Q10",
        configuration="unclassified",
        role="switch",
        confidence=0.0,
        reason="its island has no operating point",
        location=Location(file=FILE, line=41),
    )


def _group() -> Group:
    return Group(
        id="Q1+Q2",
        configuration="direct-coupled-pair",
        devices=("Q1", "Q2"),
        entry=Connection(device="Q1", terminal="emitter", net="N1"),
        exit=Connection(device="Q2", terminal="emitter", net="N3"),
        specs=Specs(voltage_gain_db=27.6, input_impedance_ohm=Complex(re=33.4, im=1.9)),
        evidence=("Q1's collector is Q2's base, no capacitor between",),
    )


def _ports() -> tuple[Port, ...]:
    return (
        Port(name="IF", net="IF", role="output", reference_ohm=None),
        Port(
            name="ANT",
            net="/rx/ANT",
            role="input",
            reference_ohm=50.0,
            impedance_ohm=Complex(re=33.4, im=-7.2),
            return_loss_db=13.2,
            return_loss_worst_db=11.6,
            return_loss_worst_hz=3e6,
            mismatch_loss_db=0.21,
        ),
    )


def _gains() -> tuple[Gain, ...]:
    return (
        Gain(
            from_="ANT",
            to="IF",
            voltage_gain=Complex(re=23.0, im=-6.0),
            voltage_gain_db=27.52,
            emf_gain_db=19.6,
            low_corner_hz=430e3,
        ),
    )


def _finding(**given: object) -> Finding:
    base: dict[str, object] = {"outcome": "violates", "severity": "note"}
    return Finding(**{**base, **given})  # type: ignore[arg-type]


def _mismatch() -> Finding:
    return _finding(
        rule="input-mismatch",
        severity="must-fix",
        subject=("Q1", "R3", "ANT"),
        message="The input of Q1 does not match the 50 Ω of port ANT.",
        effect="Level falls and ripples with cable length; a filter ahead of it loses its shape.",
        why="A filter or line delivers its response only into its own impedance.",
        fingerprint="f1a2b3c4",
        frequency_hz=3e6,
        measured=Measured(quantity="return_loss_worst_db", value=11.6, unit="dB"),
        limit=Bound(relation="at least", value=14.0, unit="dB", source="limits of the intent file"),
        location=Location(file=FILE, line=9, sheet="/rx/"),
        remedy=Remedy(
            changes=(Change(part="R3", property="r_ohm", from_=27.0, to=43.0, unit="Ω"),),
            effects=(
                Effect(
                    quantity="return_loss_worst_db", before=11.6, after=22.4, unit="dB", subject="port ANT"
                ),
                Effect(quantity="voltage_gain_db", before=27.92, after=25.8, unit="dB", subject="Q1"),
            ),
            verified_over=("nominal", "cold", "hot", "gain low", "gain high"),
        ),
    )


def _may_violate() -> Finding:
    return _finding(
        rule="stiff-divider",
        outcome="may-violate",
        severity="review",
        subject=("R1", "R2", "Q1"),
        message="The divider that biases Q1 shifts with the current gain of the transistor.",
        effect="The collector current differs from board to board.",
        why="Common practice: divider current at least ten times the base current.",
        fingerprint="0a0b0c0d",
        scenario="gain low, hot",
        state="reset",
        measured=Measured(quantity="shift_percent", value=12.8, unit="%"),
        limit=Window(relation="within", low=-10.0, high=10.0, unit="%", source="common practice"),
        caused_by="f1a2b3c4",
        location=Location(file=FILE, line=7),
    )


def _structural() -> Finding:
    return _finding(
        rule="conflicting-names",
        subject=("Q2",),
        message="The symbol of Q2 says BC237, its value 2N3904; the value was believed.",
        fingerprint="99aa",
    )


def workings() -> tuple[WorkingLine, ...]:
    """The workings of two figures of Q1 and one of Q2."""
    return (
        WorkingLine(
            subject="Q1",
            quantity="re_ohm",
            formula="re' = VT / IE",
            numbers=(("VT", 0.025693, "V"), ("IE", 4.931e-3, "A")),
            result="5.21 Ω",
            source="hand figure, kT/q at the temperature of the junction",
        ),
        WorkingLine(
            subject="Q1",
            quantity="voltage_gain",
            formula="v(output ref) / v(input ref)",
            result="24.9 ∠ -14.4°",
            source="in-place solution at f0",
        ),
        WorkingLine(subject="Q2", quantity="ic_a", formula="device equations", result="9.1 mA"),
    )
