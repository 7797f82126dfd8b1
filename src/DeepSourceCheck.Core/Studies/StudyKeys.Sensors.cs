namespace DeepSourceCheck.Core.Studies;

public static partial class StudyKeys
{
    private const string DefaultArray = "the array of the default study; " + CommonPractice;

    private static StudyKey[] Sensors() =>
    [
        new("sensors", "Electrodes, coils and what the recording passes.", new MapShape()) { Example = "{eeg: {layout: ten-ten-64}}" },
        new("sensors.eeg", "Electrodes: a layout or a table; with imported leadfields only the reference.", new MapShape())
        {
            Example = "{layout: ten-ten-64, reference: average}",
        },
        new("sensors.eeg.layout", "Sites by the 10-20, 10-10 or 10-5 rules.",
            Choice("ten-twenty-21", "ten-ten-64", "ten-ten-81", "ten-five-329"))
        {
            Example = "ten-ten-64",
        },
        new("sensors.eeg.electrodes", "Table of electrodes.", new FileShape("a table with columns name, x, y, z"))
        {
            Example = "electrodes.tsv",
        },
        new("sensors.eeg.coordinates", "Units of the table of electrodes; without it, mm.", new FileShape("a BIDS coordsystem.json"))
        {
            Example = "coordsystem.json",
        },
        new("sensors.eeg.reference",
            "What the EEG is measured against: the mean of the electrodes in use, nothing, or the mean of named electrodes.",
            Choice("average", "none"), new TextShape("the name of an electrode", 60), new TextListShape("the name of an electrode"))
        {
            Example = "average",
            Defaults = Default("average", CommonPractice, Grade.Memory),
        },
        new("sensors.eeg_derivations",
            "Differences that are read as single traces: electrode-electrode, electrode-mastoids or electrode-average.",
            new TextListShape("a difference such as Cz-M1, Cz-mastoids or Cz-average", Fewest: 0))
        {
            Example = "[Cz-mastoids]",
        },
        new("sensors.meg", "Coils: a generated array or a table.", new MapShape())
        {
            Example = "{coil: axial-gradiometer, sites: 200, baseline_mm: 60, gap_mm: 30}",
        },
        new("sensors.meg.coils", "Table of coils, one row an integration point.",
            new FileShape("a table with columns channel, kind, x_mm, y_mm, z_mm, axis_x, axis_y, axis_z, share"))
        {
            Example = "coils.tsv",
        },
        new("sensors.meg.coil", "Kind of coil at every site of the generated array.",
            Choice("magnetometer", "axial-gradiometer", "planar-gradiometer", "on-scalp", "on-scalp-triaxial"))
        {
            Example = "axial-gradiometer",
        },
        new("sensors.meg.sites", "Sites of the generated array, evenly on the cap above its lower edge.", Count(1, 10_000))
        {
            Example = "200",
            Defaults = Default(200.0, DefaultArray, Grade.Memory),
        },
        new("sensors.meg.baseline_mm", "Distance between the coils of a gradiometer.", Above0(500))
        {
            Unit = "mm",
            Example = "60",
            Defaults =
            [
                new(60.0, DefaultArray, Grade.Memory, "axial-gradiometer"),
                new(15.0, CommonPractice, Grade.Memory, "planar-gradiometer"),
            ],
        },
        new("sensors.meg.gap_mm", "Distance from the scalp to the nearest coil.", From0(300))
        {
            Unit = "mm",
            Example = "30",
            Defaults =
            [
                new(7.0, "on-scalp sensors, 6-7 mm to the cell's centre: Boto et al. 2018", Grade.Memory, "on-scalp"),
                new(7.0, "on-scalp sensors, 6-7 mm to the cell's centre: Boto et al. 2018", Grade.Memory, "on-scalp-triaxial"),
                new(30.0, "cryogenic helmets, typically 20-35 mm on an adult; at least 20 mm: Zetter et al. 2018", Grade.Memory),
            ],
        },
        new("sensors.meg_edge_deg", "Lower edge of the generated array: elevation seen from the head's centre.", new MapShape())
        {
            Example = "{front: 10, back: -35}",
        },
        new("sensors.meg_edge_deg.front", "Elevation of the edge in front.", new NumberShape(-89, 89))
        {
            Unit = "deg",
            Example = "10",
            Defaults = Default(10.0, "the rim of a helmet; " + CommonPractice, Grade.Memory),
        },
        new("sensors.meg_edge_deg.back", "Elevation of the edge at the back.", new NumberShape(-89, 89))
        {
            Unit = "deg",
            Example = "-35",
            Defaults = Default(-35.0, "the rim of a helmet; " + CommonPractice, Grade.Memory),
        },
        new("sensors.bandwidth_Hz", "Bands that the sensors pass; a response outside is refused.", new MapShape())
        {
            Example = "{meg: [0, 120]}",
        },
        new("sensors.bandwidth_Hz.eeg", "Band that the EEG passes.", BandHz) { Unit = "Hz", Example = "[0, 3000]" },
        new("sensors.bandwidth_Hz.meg", "Band that the MEG sensors pass.", BandHz) { Unit = "Hz", Example = "[0, 120]" },
        new("sensors.sampling_Hz", "Sampling rate; at least 2.5 times the upper edge of every response's band.", Above0(1e7))
        {
            Unit = "Hz",
            Example = "10000",
        },
        new("sensors.trigger", "Synchronised: stimuli fall on samples. Free: anywhere between two, which scatters the latency by 1/(sampling_Hz sqrt(12)).", Choice("synchronised", "free"))
        {
            Example = "synchronised",
            Defaults = Default("synchronised", "the stimulus runs on the recorder's clock unless stated", Grade.Derived),
        },
    ];

    private static BandShape BandHz => new(From0(1e6));
}
