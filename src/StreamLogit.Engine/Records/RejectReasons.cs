namespace StreamLogit.Engine.Records;

/// <summary>The published codes of the reject reasons.</summary>
public static class RejectReasons
{
    /// <summary>The code that stands in reject records, as <c>label-not-binary</c>.</summary>
    /// <exception cref="ArgumentOutOfRangeException"><paramref name="reason"/> is None or unknown.</exception>
    public static string Code(this RejectReason reason) => reason switch
    {
        RejectReason.NotUtf8 => "not-utf8",
        RejectReason.NotJson => "not-json",
        RejectReason.NotObject => "not-object",
        RejectReason.TooLong => "too-long",
        RejectReason.TooDeep => "too-deep",
        RejectReason.DuplicateKey => "duplicate-key",
        RejectReason.IdMissing => "id-missing",
        RejectReason.IdEmpty => "id-empty",
        RejectReason.IdUnreadable => "id-unreadable",
        RejectReason.TimeMissing => "time-missing",
        RejectReason.TimeUnreadable => "time-unreadable",
        RejectReason.NumberUnreadable => "number-unreadable",
        RejectReason.NumberOutOfRange => "number-out-of-range",
        RejectReason.CategoryUnreadable => "category-unreadable",
        RejectReason.LabelNotBinary => "label-not-binary",
        RejectReason.WeightOutOfRange => "weight-out-of-range",
        RejectReason.LabelUnknownEvent => "label-unknown-event",
        RejectReason.IdReused => "id-reused",
        RejectReason.TimeAhead => "time-ahead",
        RejectReason.RowMalformed => "row-malformed",
        _ => throw new ArgumentOutOfRangeException(nameof(reason), reason, null),
    };
}
