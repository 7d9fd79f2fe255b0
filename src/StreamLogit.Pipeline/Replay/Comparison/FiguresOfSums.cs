namespace StreamLogit.Pipeline.Replay.Comparison;

/// <summary>Computes figures from sums.</summary>
internal delegate void FiguresOfSums(ReadOnlySpan<double> sums, Span<double> figures);
