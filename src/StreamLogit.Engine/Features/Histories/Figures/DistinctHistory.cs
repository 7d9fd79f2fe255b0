using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Features.Histories.Figures;

/// <summary><see cref="HistoryKind.Distinct"/>.</summary>
internal sealed class DistinctHistory(HistoryFeature options, HistoryTable table, DistinctValues values, int firstSlot)
    : HistoryEncoding(options, table, firstSlot)
{
    protected override double Figure(HistoryTable table, RecordBatch records, int record) => values.Estimate(table.Row);
}
