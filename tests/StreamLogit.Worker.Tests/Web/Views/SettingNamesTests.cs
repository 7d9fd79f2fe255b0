using StreamLogit.Worker.Web.Views;

namespace StreamLogit.Worker.Tests.Web.Views;

public sealed class SettingNamesTests
{
    [Fact]
    public void Shorten_NumbersThatARuleShares_LeavesThemOut() =>
        Assert.Equal(
            ["sgd step=0.1", "sgd step=0.3", "ftrl step=0.1 beta=1"],
            SettingNames.Shorten(["sgd step=0.1 stepDecay=0", "sgd step=0.3 stepDecay=0", "ftrl step=0.1 beta=1"]));
}
