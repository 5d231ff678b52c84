using System.Net;
using Qc.Service.Features.Callbacks;
using Xunit;

namespace Qc.Service.Tests.Callbacks;

public sealed class CallbackAddressTests
{
    [Theory]
    [InlineData("10.1.2.3", true)]
    [InlineData("192.168.7.7", true)]
    [InlineData("203.0.113.9", true)]
    [InlineData("fd12::1", true)]
    [InlineData("169.254.169.254", false)]
    [InlineData("::ffff:169.254.169.254", false)]
    [InlineData("100.100.100.200", false)]
    [InlineData("fd00:ec2::254", false)]
    [InlineData("fe80::1", false)]
    [InlineData("0.0.0.0", false)]
    [InlineData("::", false)]
    [InlineData("127.0.0.1", false)]
    [InlineData("127.8.8.8", false)]
    [InlineData("::1", false)]
    [InlineData("::ffff:127.0.0.1", false)]
    [InlineData("224.0.0.1", false)]
    [InlineData("255.255.255.255", false)]
    public void A_callback_goes_to_the_plant_but_not_to_this_host_or_the_instance_data(string address, bool allowed) =>
        Assert.Equal(allowed, CallbackAddress.IsAllowed(IPAddress.Parse(address), toThisHost: false));

    [Fact]
    public void A_laptop_may_call_itself()
    {
        Assert.True(CallbackAddress.IsAllowed(IPAddress.Loopback, toThisHost: true));
        Assert.False(CallbackAddress.IsAllowed(IPAddress.Parse("169.254.169.254"), toThisHost: true));
    }
}
