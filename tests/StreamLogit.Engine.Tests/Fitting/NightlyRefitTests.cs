using StreamLogit.Engine.Features;
using StreamLogit.Engine.Fitting;

namespace StreamLogit.Engine.Tests.Fitting;

public sealed class NightlyRefitTests
{
    private const int RowsPerDay = 400;
    private static readonly PenaltyOptions Penalty = new() { L2 = 2, ToleranceNats = 1e-9 };

    [Fact]
    public void GoTo_EveryMidnight_FitsTheTrailingDaysAndNoOthers()
    {
        var table = SparseTable.Random(1, 8 * RowsPerDay, 2, 30);
        var refit = new NightlyRefit(new NightlyRefitOptions { TrailingDays = 3, Penalty = Penalty });
        for (int day = 0; day < 8; day++)
        {
            refit.GoTo(day);
            if (day == 0)
            {
                Assert.Null(refit.Fit);
                Assert.True(double.IsNaN(refit.LogOdds(new EncodedVector([1], [1]), 0)));
            }
            else
            {
                // The same fit made from nothing.
                var columns = new SparseColumns();
                int first = Math.Max(0, day - 3) * RowsPerDay;
                var direct = PenalisedLikelihood.Fit([table.Rows(columns, first, day * RowsPerDay)], columns, Penalty);
                Assert.Equal(direct.Rows, refit.Fit!.Rows);
                Assert.Equal(direct.Intercept, refit.Fit.Intercept, 1e-6);
                for (int slot = 0; slot < 60; slot++) Assert.Equal(direct.Coefficient(slot), refit.Fit.Coefficient(slot), 1e-6);
            }
            table.Each(day * RowsPerDay, (day + 1) * RowsPerDay, (in EncodedVector x, int label) => refit.Learn(in x, label, 1, day));
        }
        Assert.Equal(7, refit.Fits);
    }

    [Fact]
    public void Learn_ALabelThatComesLate_CountsForTheDayOfItsEvent()
    {
        var table = SparseTable.Random(2, 3 * RowsPerDay, 2, 10);
        var late = new NightlyRefit(new NightlyRefitOptions { TrailingDays = 2 });
        table.Each(RowsPerDay, 2 * RowsPerDay, (in EncodedVector x, int label) => late.Learn(in x, label, 1, 1));
        late.GoTo(2);
        Assert.Equal(RowsPerDay, late.Fit!.Rows);
        table.Each(0, RowsPerDay, (in EncodedVector x, int label) => late.Learn(in x, label, 1, 0)); // out of every later window
        table.Each(2 * RowsPerDay, 3 * RowsPerDay, (in EncodedVector x, int label) => late.Learn(in x, label, 1, 1));
        late.GoTo(2);
        Assert.Equal(1, late.Fits);
        late.GoTo(3);
        Assert.Equal(2 * RowsPerDay, late.Fit!.Rows);
        late.GoTo(4);
        Assert.Null(late.Fit);
    }

    [Fact]
    public void TakeBack_AWrongLabel_IsInNoLaterFit()
    {
        var (corrected, right) = (new NightlyRefit(new NightlyRefitOptions()), new NightlyRefit(new NightlyRefitOptions()));
        for (int i = 0; i < 300; i++)
        {
            var x = new EncodedVector([i % 3], [1]);
            corrected.Learn(in x, 0, 1, 10);
            right.Learn(in x, i % 4 == 0 ? 1 : 0, 1, 10);
        }
        for (int i = 0; i < 300; i += 4)
        {
            var x = new EncodedVector([i % 3], [1]);
            corrected.TakeBack(in x, 0, 1, 10);
            corrected.Learn(in x, 1, 1, 10);
        }
        corrected.GoTo(11);
        right.GoTo(11);
        Assert.Equal(300, corrected.Fit!.Rows);
        for (int slot = 0; slot < 3; slot++)
            Assert.Equal(right.LogOdds(new EncodedVector([slot], [1]), 11), corrected.LogOdds(new EncodedVector([slot], [1]), 11), 1e-3);
    }

    [Fact]
    public void GoTo_LabelsOfOneKindOnly_ScoresTheirRate()
    {
        var refit = new NightlyRefit(new NightlyRefitOptions());
        for (int i = 0; i < 99; i++) refit.Learn(new EncodedVector([i % 3], [1]), 0, 1, 10);
        refit.GoTo(11);
        Assert.Equal(Math.Log(0.5 / 99.5), refit.LogOdds(new EncodedVector([1], [1]), 11), 1e-12);
        for (int i = 0; i < 99; i++) refit.Learn(new EncodedVector([i % 3], [1]), i % 3 == 0 ? 1 : 0, 1, 11);
        refit.GoTo(12);
        Assert.True(refit.LogOdds(new EncodedVector([0], [1]), 12) > refit.LogOdds(new EncodedVector([1], [1]), 12) + 1);
    }

    [Fact]
    public void LogOdds_OfAnEarlierDay_IsThatOfItsFitWhileItIsKept()
    {
        var refit = new NightlyRefit(new NightlyRefitOptions { TrailingDays = 2, KeptFits = 3 });
        var given = new Dictionary<long, double>();
        for (int day = 0; day < 6; day++)
        {
            refit.GoTo(day);
            given[day] = refit.LogOdds(new EncodedVector([7], [1]), day);
            for (int i = 0; i < 50; i++) refit.Learn(new EncodedVector([7], [1]), i <= 5 * day ? 1 : 0, 1, day);
        }
        for (int day = 3; day < 6; day++) Assert.Equal(given[day], refit.LogOdds(new EncodedVector([7], [1]), day));
        Assert.True(given[5] > given[4] && given[4] > given[3]);
        Assert.True(double.IsNaN(refit.LogOdds(new EncodedVector([7], [1]), 2)));
    }

    [Fact]
    public void GoTo_DaysWithoutEvents_FitsEveryMidnight()
    {
        var refit = new NightlyRefit(new NightlyRefitOptions { TrailingDays = 3 });
        for (int i = 0; i < 50; i++) refit.Learn(new EncodedVector([7], [1]), i % 2, 1, 100);
        refit.GoTo(101);
        refit.GoTo(103);
        Assert.Equal(3, refit.Fits);
        Assert.False(double.IsNaN(refit.LogOdds(new EncodedVector([7], [1]), 102)));
        refit.GoTo(1_000_000);
        Assert.Equal(3, refit.Fits);
        Assert.Null(refit.Fit);
    }

    [Theory]
    [InlineData(0, 0)]
    [InlineData(86_399_999_999, 0)]
    [InlineData(86_400_000_000, 1)]
    [InlineData(-1, -1)]
    [InlineData(-86_400_000_000, -1)]
    [InlineData(-86_400_000_001, -2)]
    public void DayOf_AnyTime_IsItsCalendarDay(long timeMicroseconds, long day) => Assert.Equal(day, NightlyRefit.DayOf(timeMicroseconds));
}
