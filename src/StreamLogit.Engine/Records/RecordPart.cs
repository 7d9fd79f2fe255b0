namespace StreamLogit.Engine.Records;

/// <summary>One thing that records are read for: the id, the time, the label, the weight, the label's time or a field of the schema.</summary>
/// <param name="Role">Which of them.</param>
/// <param name="Path">Where it stands in a record.</param>
/// <param name="Field">The place of a field in the schema; -1 of the others.</param>
/// <param name="Use">What the features want of a field.</param>
/// <param name="MakesEvent">Whether its key turns a label into an event: it is a field, and not one that every record has.</param>
internal sealed record RecordPart(PartRole Role, string Path, int Field, FieldUse Use, bool MakesEvent)
{
    /// <summary>Of several faults of a record the one with the lowest rank is told.</summary>
    public int Rank => Role == PartRole.Field ? (int)PartRole.Field + Field : (int)Role;

    /// <summary>The reason of a record whose part is of a wrong kind.</summary>
    public RejectReason Unreadable => Role switch
    {
        PartRole.Id => RejectReason.IdUnreadable,
        PartRole.Time or PartRole.LabelTime => RejectReason.TimeUnreadable,
        PartRole.Label => RejectReason.LabelNotBinary,
        PartRole.Weight => RejectReason.WeightOutOfRange,
        _ => Use.HasFlag(FieldUse.Number) ? RejectReason.NumberUnreadable : RejectReason.CategoryUnreadable,
    };

    /// <summary>How messages name it.</summary>
    public override string ToString() => $"{Name} '{Path}'";

    private string Name => Role switch
    {
        PartRole.LabelTime => "label's time",
        _ => Role.ToString().ToLowerInvariant(),
    };
}
