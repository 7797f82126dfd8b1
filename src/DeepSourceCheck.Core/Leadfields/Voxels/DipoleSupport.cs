namespace DeepSourceCheck.Core.Leadfields.Voxels;

/// <summary>What carries a dipole: how far its load is from the ideal one.</summary>
public enum DipoleSupport
{
    /// <summary>All nodes around it lie within source tissue; also every load by the element's gradient.</summary>
    Whole,

    /// <summary>Fewer nodes, all within source tissue: less than two voxels from its border.</summary>
    Partial,

    /// <summary>Nodes on the border of source tissue had to be taken: in a sheet of it one or two voxels thick.</summary>
    Border,

    /// <summary>No such nodes give the moment: the element's gradient stands in.</summary>
    Element,
}
