namespace StreamLogit.Engine;

/// <summary>Takes a labelled event.</summary>
public delegate void LabelledEventTaker(in LabelledEvent labelled);
