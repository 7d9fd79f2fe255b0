namespace StreamLogit.Engine.Records;

/// <summary>What a record holds in one field of the schema.</summary>
public struct FieldValue
{
    /// <summary>The value of a present field that is used as a number.</summary>
    public double Number;

    /// <summary>The hash of the text of a present field that is used as a category.</summary>
    public ulong Hash;

    /// <summary>Where that text stands in the batch's bytes.</summary>
    public int TextStart;

    /// <summary>Its length in bytes.</summary>
    public int TextLength;

    /// <summary>Whether the record has the field, and not as null.</summary>
    public bool IsPresent;
}
