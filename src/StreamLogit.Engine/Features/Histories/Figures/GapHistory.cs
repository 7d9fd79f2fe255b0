using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Features.Histories.Figures;

/// <summary><see cref="HistoryKind.Gap"/>: 0 for an event that is older than the key's newest.</summary>
internal sealed class GapHistory(HistoryFeature options, HistoryTable table, int firstSlot) : HistoryEncoding(options, table, firstSlot)
{
    private const double MicrosecondsPerSecond = 1e6;

    protected override double Figure(HistoryTable table, RecordBatch records, int record)
    {
        if (!table.IsKnown) return ReasonWords.UnknownFigure;
        return Math.Max(0, (double)records.Records[record].TimeMicroseconds - table.PreviousClockMicroseconds) / MicrosecondsPerSecond;
    }
}
