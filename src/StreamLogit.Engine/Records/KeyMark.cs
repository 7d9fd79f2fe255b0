namespace StreamLogit.Engine.Records;

/// <summary>A key of an object that is still open.</summary>
internal unsafe struct KeyMark
{
    /// <summary>The fingerprint of its name.</summary>
    public ulong Fingerprint;

    /// <summary>Its name in the record, or null if it is unescaped elsewhere.</summary>
    public byte* Raw;

    /// <summary>Where its unescaped name starts.</summary>
    public int UnescapedStart;

    /// <summary>The length of its name.</summary>
    public int Length;
}
