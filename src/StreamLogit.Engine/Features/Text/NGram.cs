namespace StreamLogit.Engine.Features.Text;

/// <summary>A part of a text.</summary>
/// <param name="Hash">Its hash, with the feature's seed.</param>
/// <param name="Start">Its first byte in the text.</param>
/// <param name="Length">Its bytes.</param>
internal readonly record struct NGram(ulong Hash, int Start, int Length);
