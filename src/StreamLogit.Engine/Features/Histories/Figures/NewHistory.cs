using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Features.Histories.Figures;

/// <summary><see cref="HistoryKind.New"/>. Its table's keys are made of the key and the value; rows older than the time are as good as none.</summary>
internal sealed class NewHistory(HistoryFeature options, HistoryTable table, HistoryClock clock, int firstSlot)
    : HistoryEncoding(options, table, firstSlot)
{
    protected override double Figure(HistoryTable table, RecordBatch records, int record) =>
        table.IsKnown && (double)clock.Microseconds - table.PreviousClockMicroseconds <= Options.WithinMicroseconds ? 0 : 1;
}
