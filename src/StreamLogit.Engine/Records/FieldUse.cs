namespace StreamLogit.Engine.Records;

/// <summary>What the features want of a field.</summary>
[Flags]
public enum FieldUse
{
    /// <summary>Nothing.</summary>
    None = 0,

    /// <summary>Its value as a number.</summary>
    Number = 1,

    /// <summary>Its text and the hash of its text.</summary>
    Category = 2,
}
