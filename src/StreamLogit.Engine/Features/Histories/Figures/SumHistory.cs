using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Features.Histories.Figures;

/// <summary><see cref="HistoryKind.Sum"/>.</summary>
internal sealed class SumHistory(HistoryFeature options, HistoryTable table, ValueTotal total, int firstSlot)
    : HistoryEncoding(options, table, firstSlot)
{
    protected override double Figure(HistoryTable table, RecordBatch records, int record) => total.Sum(table.Row);
}
