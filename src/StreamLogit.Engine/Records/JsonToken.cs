namespace StreamLogit.Engine.Records;

/// <summary>One value as it stands in the bytes of a record.</summary>
internal unsafe struct JsonToken
{
    /// <summary>What it is.</summary>
    public JsonKind Kind;

    /// <summary>Whether it is a string with escapes in it.</summary>
    public bool IsEscaped;

    /// <summary>Its first byte; of a string the one behind the quote.</summary>
    public byte* Start;

    /// <summary>Its length in bytes; of a string without the quotes.</summary>
    public int Length;

    /// <summary>The double nearest to a number, infinite if it is too large for one.</summary>
    public double Number;

    /// <summary>Its bytes as they stand in the record.</summary>
    public readonly ReadOnlySpan<byte> Raw => new(Start, Length);
}
