namespace StreamLogit.Engine.Records;

/// <summary>What a record turned out to be.</summary>
public enum RecordKind
{
    /// <summary>It cannot be used; its reason says why.</summary>
    Reject,

    /// <summary>An event whose label is not known yet.</summary>
    Event,

    /// <summary>An event that came with its label.</summary>
    LabelledEvent,

    /// <summary>A label for an event scored before.</summary>
    Label,
}
