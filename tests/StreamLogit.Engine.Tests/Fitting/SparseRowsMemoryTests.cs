using StreamLogit.Engine.Features;
using StreamLogit.Engine.Fitting;

namespace StreamLogit.Engine.Tests.Fitting;

/// <summary>Alone, because what is measured is the memory of the whole process.</summary>
[CollectionDefinition(nameof(SparseRowsMemoryTests), DisableParallelization = true)]
[Collection(nameof(SparseRowsMemoryTests))]
public class SparseRowsMemoryTests
{
    [Fact]
    public void Add_ManyOneHotRows_TakesFourBytesAnEntryAndNineARow()
    {
        var columns = new SparseColumns();
        int[] slots = new int[5];
        double[] ones = [1, 1, 1, 1, 1];
        long before = GC.GetTotalMemory(forceFullCollection: true);
        var rows = new SparseRows(columns);
        for (int i = 0; i < 400_000; i++)
        {
            for (int k = 0; k < 5; k++) slots[k] = 100 * k + i % (7 * k + 5);
            rows.Add(new EncodedVector(slots, ones), i & 1);
        }
        rows.Trim();
        long bytes = GC.GetTotalMemory(forceFullCollection: true) - before;
        GC.KeepAlive(rows);
        Assert.InRange(bytes / 400_000.0, 28.5, 30.5);
    }
}
