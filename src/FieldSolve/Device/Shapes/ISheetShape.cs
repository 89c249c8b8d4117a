namespace FieldSolve.Device;

/// <summary>A kind of sheet that a device file can describe.</summary>
internal interface ISheetShape
{
    /// <summary>Its key in [sheet].</summary>
    string Key { get; }

    /// <summary>What to write behind the key, for messages.</summary>
    string Example { get; }

    /// <summary>Reads the shape's own keys and makes the rim; null, with faults reported, if they are no good.</summary>
    /// <param name="section">The table behind the key; the caller finishes it.</param>
    /// <param name="files">Reads the files it names.</param>
    SheetPlan? Read(Section section, FileSource files);
}
