namespace StreamLogit.Engine.Records;

/// <summary>What a value is read for.</summary>
internal enum PartRole
{
    /// <summary>Nothing.</summary>
    Unread,

    /// <summary>The id.</summary>
    Id,

    /// <summary>The time.</summary>
    Time,

    /// <summary>The label.</summary>
    Label,

    /// <summary>The weight.</summary>
    Weight,

    /// <summary>The time at which the label in an event became known.</summary>
    LabelTime,

    /// <summary>A field of the schema.</summary>
    Field,
}
