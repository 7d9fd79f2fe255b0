using StreamLogit.Engine.Health;

namespace StreamLogit.Engine.Awaiting;

/// <summary>What became of a kept event. Lies beside the segment's bytes, which never change.</summary>
/// <param name="State">What is known of it.</param>
/// <param name="Count">How its label was counted, where it has one.</param>
internal readonly record struct LabelMark(EventState State, LabelCount Count);
