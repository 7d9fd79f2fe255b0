namespace StreamLogit.Engine.Records;

/// <summary>Why a record cannot be used. The codes that are published (<see cref="RejectReasons.Code"/>) never change their meaning.</summary>
public enum RejectReason
{
    /// <summary>The record is usable.</summary>
    None,

    /// <summary>The bytes are not UTF-8, or an escape is half of a surrogate pair.</summary>
    NotUtf8,

    /// <summary>The bytes are not JSON (RFC 8259), or more follows the value.</summary>
    NotJson,

    /// <summary>The JSON value is not an object.</summary>
    NotObject,

    /// <summary>The record is longer than the definition allows.</summary>
    TooLong,

    /// <summary>Objects and arrays are nested deeper than the definition allows.</summary>
    TooDeep,

    /// <summary>An object has the same key twice.</summary>
    DuplicateKey,

    /// <summary>There is no id, or it is null.</summary>
    IdMissing,

    /// <summary>The id is an empty string.</summary>
    IdEmpty,

    /// <summary>The id is neither a string nor a number.</summary>
    IdUnreadable,

    /// <summary>There is no time, or it is null.</summary>
    TimeMissing,

    /// <summary>The time is not written as the definition says.</summary>
    TimeUnreadable,

    /// <summary>A numeric field holds something else than a number.</summary>
    NumberUnreadable,

    /// <summary>A number lies beyond ±1e15 (a JSON number may be too large for a double).</summary>
    NumberOutOfRange,

    /// <summary>A categorical field holds an object or an array.</summary>
    CategoryUnreadable,

    /// <summary>The label is not among the definition's label values.</summary>
    LabelNotBinary,

    /// <summary>The weight is not a number, or not within 0 to 1e6.</summary>
    WeightOutOfRange,

    /// <summary>A label for an event that is not known, and that did not come within the time for early labels.</summary>
    LabelUnknownEvent,

    /// <summary>A second event with the id of an event that is still kept for its label.</summary>
    IdReused,

    /// <summary>A time further ahead of the stream's clock than the definition allows.</summary>
    TimeAhead,

    /// <summary>A row of comma-separated values that is not quoted as RFC 4180 says, or whose cells are not as many as the header's.</summary>
    RowMalformed,
}
