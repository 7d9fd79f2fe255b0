namespace StreamLogit.Engine.Records;

/// <summary>What keeps a text from being a time.</summary>
internal enum TimeFault
{
    None,

    /// <summary>It is not written in the form wanted.</summary>
    Form,

    /// <summary>It has no offset, so it names no moment.</summary>
    NoOffset,

    /// <summary>There is no such day, or no such time of day.</summary>
    Calendar,

    /// <summary>In UTC it lies outside the years 0001 to 9999.</summary>
    Range,
}
